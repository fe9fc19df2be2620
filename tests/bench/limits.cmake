add_executable(limits_bench ${CMAKE_CURRENT_LIST_DIR}/limits_bench.cpp)
target_link_libraries(limits_bench PRIVATE judge)
