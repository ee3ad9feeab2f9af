// The parts of a loop sequencer, written by hand from what the parts do: memories, the latch or counter that holds
// the state, the latch of the outputs, the decoder, and the clock that makes a cell longer when the stretch pin says
// so. A board that wires them is made by loop_board.py. Two units of time are one tick of the master clock.

// An EEPROM: its output follows its address.
module memory #(parameter ADDRESS_PINS = 1, DATA_PINS = 8, FILE = "") (
	input [ADDRESS_PINS-1:0] address,
	output [DATA_PINS-1:0] data
);
	reg [DATA_PINS-1:0] words [0:(1 << ADDRESS_PINS) - 1];
	initial $readmemh(FILE, words);
	assign data = words[address];
endmodule

// Edge-triggered D latches, as many as asked. What they hold when the power comes on is given; x where it does not
// matter.
module latch #(parameter BITS = 1, POWER_UP = {BITS{1'bx}}) (
	input clock,
	input [BITS-1:0] d,
	output reg [BITS-1:0] q
);
	initial q = POWER_UP;
	always @(posedge clock) q <= d;
endmodule

// A binary counter of four bits with the function table of the 74x161 (clear at once) or 74x163 (clear with the clock
// edge): clear goes before load, load before counting, and counting takes both enables. Function tables: from memory.
module counter_4 #(parameter ASYNCHRONOUS = 0, POWER_UP = 0) (
	input clock, clear_n, load_n, enp, ent,
	input [3:0] d,
	output reg [3:0] q,
	output rco
);
	initial q = POWER_UP;
	assign rco = ent && q == 4'd15;

	wire clear_at_once_n = clear_n || !ASYNCHRONOUS;
	always @(posedge clock or negedge clear_at_once_n)
		if (!clear_n) q <= 0;
		else if (!load_n) q <= d;
		else if (enp && ent) q <= q + 4'd1;
endmodule

// As many of them as the state takes, each enabled by the carry of the one before.
module counter #(parameter BITS = 4, ASYNCHRONOUS = 0, POWER_UP = 0) (
	input clock, clear_n,
	output [BITS-1:0] q
);
	localparam PARTS = (BITS + 3) / 4;
	wire [4*PARTS-1:0] count;
	wire [PARTS:0] carry;
	assign carry[0] = 1'b1;
	assign q = count[BITS-1:0];

	genvar part;
	generate
		for (part = 0; part < PARTS; part = part + 1) begin : parts
			counter_4 #(.ASYNCHRONOUS(ASYNCHRONOUS), .POWER_UP((POWER_UP >> (4 * part)) & 15)) four (
				.clock(clock), .clear_n(clear_n), .load_n(1'b1), .enp(1'b1), .ent(carry[part]),
				.d(4'd0), .q(count[4*part +: 4]), .rco(carry[part + 1])
			);
		end
	endgenerate
endmodule

// One of 2^BITS outputs is low: the one whose number is the code.
module decoder #(parameter BITS = 3) (
	input [BITS-1:0] code,
	output [(1 << BITS)-1:0] y_n
);
	assign y_n = ~({{(1 << BITS)-1{1'b0}}, 1'b1} << code);
endmodule

// What hardware further down makes of a pin: the same, some cells later.
module delay #(parameter CELLS = 1) (
	input clock, d,
	output q
);
	wire [CELLS:0] stage;
	assign stage[0] = d;
	assign q = stage[CELLS];
	genvar cell_number;
	generate
		for (cell_number = 0; cell_number < CELLS; cell_number = cell_number + 1) begin : cells
			latch one (.clock(clock), .d(stage[cell_number]), .q(stage[cell_number + 1]));
		end
	endgenerate
endmodule

// An edge at the end of every cell. A cell that has lasted CELL ticks goes on for STRETCH more if it is to be
// stretched.
module cell_clock #(parameter CELL = 1, STRETCH = 0) (
	input stretched,
	output reg clock
);
	always begin
		#1 clock = 0;
		#(2 * CELL - 1);
		if (stretched === 1'b1) #(2 * STRETCH);
		clock = 1;
	end
endmodule

// A line for each cell, half a tick after it has begun: its first tick, the state, the levels of all pins. Ends after
// CELLS of them.
module recorder #(parameter BITS = 1, PINS = 1, CELLS = 1) (
	input clock,
	input [BITS-1:0] state,
	input [PINS-1:0] pins
);
	integer recorded = 0;
	always @(negedge clock) begin
		$display("%0d %h %b", ($time - 1) / 2, state, pins);
		recorded = recorded + 1;
		if (recorded == CELLS) $finish(0);
	end
endmodule
