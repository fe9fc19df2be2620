add_test(NAME "reference: the second opinion on twins, against sequences worked by hand"
         COMMAND /usr/bin/python3 -B ${CMAKE_CURRENT_LIST_DIR}/numpy_twins_test.py)
set_tests_properties("reference: the second opinion on twins, against sequences worked by hand" PROPERTIES LABELS reference)

add_executable(print_twins ${CMAKE_CURRENT_LIST_DIR}/print_twins.cpp)
target_link_libraries(print_twins PRIVATE arithmetic)
add_test(NAME "reference: twins against NumPy, bit for bit"
         COMMAND /usr/bin/python3 -B ${CMAKE_CURRENT_LIST_DIR}/twins_test.py $<TARGET_FILE:print_twins>)
set_tests_properties("reference: twins against NumPy, bit for bit" PROPERTIES LABELS reference)
