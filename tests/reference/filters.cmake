add_executable(print_filters ${CMAKE_CURRENT_LIST_DIR}/print_filters.cpp)
target_link_libraries(print_filters PRIVATE filters)
add_test(NAME "reference: filters against SciPy"
         COMMAND /usr/bin/python3 ${CMAKE_CURRENT_LIST_DIR}/filters_test.py $<TARGET_FILE:print_filters>)
set_tests_properties("reference: filters against SciPy" PROPERTIES LABELS reference)

add_test(NAME "reference: recursions against SciPy and fifty digits"
         COMMAND /usr/bin/python3 ${CMAKE_CURRENT_LIST_DIR}/recursions_test.py $<TARGET_FILE:print_filters>)
add_test(NAME "reference: rates, medians and starts against SciPy and NumPy"
         COMMAND /usr/bin/python3 ${CMAKE_CURRENT_LIST_DIR}/rates_test.py $<TARGET_FILE:print_filters>)
set_tests_properties("reference: recursions against SciPy and fifty digits"
                     "reference: rates, medians and starts against SciPy and NumPy" PROPERTIES LABELS reference)
