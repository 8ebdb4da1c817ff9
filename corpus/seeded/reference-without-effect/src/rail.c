#include <stdint.h>

#define PAR8_REF_MV     5121u

extern volatile uint8_t par8_code;

uint8_t rail_dv(void)
{
    return (uint8_t)(par8_code * PAR8_REF_MV * 2u / 256u / 100u);
}
