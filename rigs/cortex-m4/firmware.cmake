# The board's firmware as part of the main build, when its compiler is there. It is a project of its own,
# because one CMake project has one compiler. The images land in <build>/firmware.
find_program(ARM_NONE_EABI_GCC arm-none-eabi-gcc)
if(ARM_NONE_EABI_GCC)
    include(ExternalProject)
    ExternalProject_Add(firmware
        PREFIX ${CMAKE_BINARY_DIR}/firmware-project
        SOURCE_DIR ${CMAKE_CURRENT_LIST_DIR}
        BINARY_DIR ${CMAKE_BINARY_DIR}/firmware
        CMAKE_ARGS -DCMAKE_TOOLCHAIN_FILE=${CMAKE_CURRENT_LIST_DIR}/toolchain.cmake
            -DCMAKE_C_COMPILER_LAUNCHER=${CMAKE_C_COMPILER_LAUNCHER}
        BUILD_ALWAYS ON # its own build tool knows what has changed
        INSTALL_COMMAND "")
else()
    message(STATUS "arm-none-eabi-gcc is not installed: no firmware for the emulated board, and no tests of it")
endif()
