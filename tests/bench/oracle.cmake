add_executable(oracle_bench ${CMAKE_CURRENT_LIST_DIR}/oracle_bench.cpp ${CMAKE_CURRENT_LIST_DIR}/twin_jobs.cpp)
target_link_libraries(oracle_bench PRIVATE arithmetic measure)
