#include "hw.h"
#include "sense.h"

static uint16_t fetch(void)
{
    return hw_aerator();
}

uint32_t sense_aerator_dmv(void)
{
    return fetch() * 33000u / 4096u;
}
