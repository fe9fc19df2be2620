add_test(NAME "reference: the second opinion on twins, against sequences worked by hand"
         COMMAND /usr/bin/python3 -B ${CMAKE_CURRENT_LIST_DIR}/numpy_twins_test.py)
set_tests_properties("reference: the second opinion on twins, against sequences worked by hand" PROPERTIES LABELS reference)
