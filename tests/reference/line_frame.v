`timescale 1ns / 1ps
// The parts that a line-frame sequencer has beside those of loop.v: memories that take a while, as a counter that is
// cleared at once needs, and latches and counters that obey an edge only where they are told to. A board that wires them is
// made by line_frame_board.py. Two nanoseconds are one tick of the master clock. Compile this file first: its timescale
// is for all.

// An EEPROM that swallows what its address does on the way: the output follows an address that has stood for a tenth.
module slow_memory #(parameter ADDRESS_PINS = 1, DATA_PINS = 8, FILE = "") (
	input [ADDRESS_PINS-1:0] address,
	output [DATA_PINS-1:0] data
);
	reg [DATA_PINS-1:0] words [0:(1 << ADDRESS_PINS) - 1];
	initial $readmemh(FILE, words);
	assign #0.1 data = words[address];
endmodule

// Edge-triggered D latches with an enable (74x377). Function: from memory.
module enabled_latch #(parameter BITS = 1, POWER_UP = {BITS{1'bx}}) (
	input clock, enable,
	input [BITS-1:0] d,
	output reg [BITS-1:0] q
);
	initial q = POWER_UP;
	always @(posedge clock) if (enable) q <= d;
endmodule

// A counter of 74x161 (clear at once) or 74x163 (with the edge) that counts where it is enabled. The word's clear is 1
// where asserted, the counter's pin is low: so there is an inverter. A 74x163 obeys clear whether it is enabled or not; so
// for that the inverter is a NAND with the enable.
module stage_counter #(parameter BITS = 4, ASYNCHRONOUS = 0, POWER_UP = 0) (
	input clock, enable, clear,
	output [BITS-1:0] q
);
	localparam PARTS = (BITS + 3) / 4;
	wire clear_n = ~(clear & (enable | (ASYNCHRONOUS != 0)));
	wire [4*PARTS-1:0] count;
	wire [PARTS:0] carry;
	assign carry[0] = enable;
	assign q = count[BITS-1:0];

	genvar part;
	generate
		for (part = 0; part < PARTS; part = part + 1) begin : parts
			counter_4 #(.ASYNCHRONOUS(ASYNCHRONOUS), .POWER_UP((POWER_UP >> (4 * part)) & 15)) four (
				.clock(clock), .clear_n(clear_n), .load_n(1'b1), .enp(enable), .ent(carry[part]),
				.d(4'd0), .q(count[4*part +: 4]), .rco(carry[part + 1])
			);
		end
	endgenerate
endmodule

// Says so when a wire moves later than half of the half tick after which a cell is looked at: then it has not settled.
module settled #(parameter BITS = 1) (
	input clock,
	input [BITS-1:0] wires
);
	reg quiet = 0;
	always @(posedge clock) begin
		quiet = 0;
		#0.5 quiet = 1;
	end
	always @(wires) if (quiet) $display("unsettled at %0t", $realtime);
endmodule
