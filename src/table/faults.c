#include "table/faults.h"

struct fault fault_at(enum rule rule, uint32_t cell)
{
	return (struct fault){
		.rule = rule, .cell = cell, .other = NO_CELL, .field = NO_SUBJECT, .signal = NO_SUBJECT, .state = NO_STATE};
}

bool faults_full(const struct faults *faults, enum rule rule)
{
	size_t count = 0;
	for (size_t index = 0; index < faults->count; index++)
		count += faults->list[index].rule == rule;
	return count >= FAULTS_OF_A_RULE || faults->count == FAULTS_LIMIT;
}

void faults_add(struct faults *faults, struct fault fault)
{
	if (!faults_full(faults, fault.rule))
		faults->list[faults->count++] = fault;
}

bool faults_memory(struct faults *faults)
{
	faults->memory_out = true;
	return false;
}
