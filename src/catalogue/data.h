// The catalogues' YAML files, built into the program byte for byte. The Makefile makes a pair like this from
// every src/catalogue/NAME.yaml, in catalogue_data.c under the build folder.
#ifndef SCANLATCH_CATALOGUE_DATA_H
#define SCANLATCH_CATALOGUE_DATA_H

#include <stddef.h>

// src/catalogue/parts.yaml, standards.yaml and crystals.yaml. A NUL follows the bytes and is not counted in the length.
extern const unsigned char catalogue_parts[];
extern const size_t catalogue_parts_length;
extern const unsigned char catalogue_standards[];
extern const size_t catalogue_standards_length;
extern const unsigned char catalogue_crystals[];
extern const size_t catalogue_crystals_length;

#endif
