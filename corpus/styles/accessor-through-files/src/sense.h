#pragma once
#include <stdint.h>
uint32_t sense_aerator_dmv(void);
