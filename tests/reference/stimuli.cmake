add_executable(print_stimuli print_stimuli.cpp)
target_link_libraries(print_stimuli PRIVATE stimuli)
add_test(NAME "reference: stimuli"
         COMMAND /usr/bin/python3 ${CMAKE_CURRENT_SOURCE_DIR}/stimuli_test.py $<TARGET_FILE:print_stimuli>)
set_tests_properties("reference: stimuli" PROPERTIES LABELS reference)
