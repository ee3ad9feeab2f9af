// What is different in a machine of two stages: where its frame starts, how its lap is run, and what of its state the plan
// says outright. Internal to proof/.
#ifndef SCANLATCH_PROOF_LINE_FRAME_H
#define SCANLATCH_PROOF_LINE_FRAME_H

#include "proof/trial.h"

// The state bits that count lines and cells (design page 1.5): the frame stage's number the frame's lines from 0; the
// line stage's number each line's cells from 0, unless holds, decoded fields or a start say otherwise. Fills
// trial->numbered, in the proofs' arena. False when memory is out.
bool line_frame_number(struct trial *trial);

// The whole state in the frame's first cell. With has_start, the line stage's is line_start; otherwise, if it does not number
// the cells, it is found: every line begins in the same. Cannot fail.
uint32_t line_frame_start(const struct trial *trial, bool has_start, uint32_t line_start);

// Runs the lap from a state, into trial->lap, whose arrays are there. Cannot fail.
void line_frame_lap(struct trial *trial, uint32_t start);

// Finds where the lap's stages leave the plan: the first cell at which one holds another number than planned, or does not come
// back, or a line of the wrong kind, if anything comes of it. Fills departed_cell, departure and departure_certain. Decoded
// pins need not be known. False when memory is out.
bool line_frame_depart(struct trial *trial);

#endif
