add_executable(print_measure ${CMAKE_CURRENT_LIST_DIR}/print_measure.cpp)
target_link_libraries(print_measure PRIVATE measure)
add_test(NAME "reference: measures against NumPy and SciPy"
         COMMAND /usr/bin/python3 ${CMAKE_CURRENT_LIST_DIR}/measure_test.py $<TARGET_FILE:print_measure>)
set_tests_properties("reference: measures against NumPy and SciPy" PROPERTIES LABELS reference)
