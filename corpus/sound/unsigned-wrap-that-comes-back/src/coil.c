#include <stdint.h>

uint16_t bip_read(void);

int32_t coil_ma(void)
{
    int16_t centred = (int16_t)(bip_read() - 2048u);

    return centred * 2500 / 2048;
}
