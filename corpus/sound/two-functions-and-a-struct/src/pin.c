#include "pump.h"

uint32_t pin_dmv(uint16_t code)
{
    return code * 25000u / 4096u;
}
