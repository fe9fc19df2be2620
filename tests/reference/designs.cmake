add_executable(print_designs ${CMAKE_CURRENT_LIST_DIR}/print_designs.cpp)
target_link_libraries(print_designs PRIVATE filters)
add_test(NAME "reference: designs and closed forms against SciPy"
         COMMAND /usr/bin/python3 ${CMAKE_CURRENT_LIST_DIR}/designs_test.py $<TARGET_FILE:print_designs>)
set_tests_properties("reference: designs and closed forms against SciPy" PROPERTIES LABELS reference)
