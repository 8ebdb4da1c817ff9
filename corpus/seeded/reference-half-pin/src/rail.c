#include <stdint.h>

#define PAR8_VREF_MV    2560        /* measured at pin 9 */

uint8_t par8_get(void);

uint16_t rail_mv(void)
{
    return (uint16_t)((long)par8_get() * PAR8_VREF_MV * 3 / 256);
}
