#include "sense.h"
#include "state.h"

struct state state;

void state_refresh(void)
{
    state.aerator_ma = (uint16_t)(sense_aerator_dmv() * 2u / 20u);
}
