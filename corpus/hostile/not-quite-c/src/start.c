        .syntax unified
        .thumb
Reset_Handler:
        ldr   r0, =_estack
        bl    main
