/* Fischzucht - Wasserstand im Becken
 * Größe: 0..4 m, Messumformer 4-20 mA an 150 Ohm ± 0,1 %
 */
#include <stdint.h>
#include "wandler.h"

#define SHUNT_OHM   150         /* Bürde 150 Ø */
#define REF_MV      3300

uint32_t becken_mm(void)
{
    uint32_t dmv = (uint32_t)wandler_lesen(EING_BECKEN) * REF_MV * 10 / 4096;
    uint32_t ua = dmv * 100 / SHUNT_OHM;    /* µA */

    return ua > 4000 ? (ua - 4000) / 4 : 0; /* 4 µA je mm */
}
