# Cross compiler for the CW-7's processor: cmake -S rigs/cortex-m4 -B BUILD -DCMAKE_TOOLCHAIN_FILE=rigs/cortex-m4/toolchain.cmake
set(CMAKE_SYSTEM_NAME Generic)
set(CMAKE_SYSTEM_PROCESSOR cortex-m4)

find_program(ARM_NONE_EABI_GCC arm-none-eabi-gcc REQUIRED)
set(CMAKE_C_COMPILER ${ARM_NONE_EABI_GCC})
set(CMAKE_EXECUTABLE_SUFFIX_C .elf)

# No image can be linked before our own linker script is known.
set(CMAKE_TRY_COMPILE_TARGET_TYPE STATIC_LIBRARY)
# The filters are integer: without floating point in use, interrupts stack eight words instead of 26.
set(CMAKE_C_FLAGS_INIT "-mcpu=cortex-m4 -mthumb -mfloat-abi=soft")

set(CMAKE_FIND_ROOT_PATH_MODE_PROGRAM NEVER)
set(CMAKE_FIND_ROOT_PATH_MODE_LIBRARY ONLY)
set(CMAKE_FIND_ROOT_PATH_MODE_INCLUDE ONLY)
