// Runs numbered tasks on a fixed number of threads. Results go to slots fixed by the task's number, so that they
// do not depend on the number of threads; knows nothing of what the tasks do.
#pragma once

#include <atomic>
#include <condition_variable>
#include <cstddef>
#include <exception>
#include <functional>
#include <mutex>
#include <thread>
#include <vector>

namespace rivalfold {

class WorkerPool {
public:
    /// `threads` workers in all, the calling thread among them; at least 1.
    explicit WorkerPool(unsigned threads);
    ~WorkerPool();
    WorkerPool(const WorkerPool&) = delete;
    WorkerPool& operator=(const WorkerPool&) = delete;

    unsigned size() const { return static_cast<unsigned>(threads_.size()) + 1; }
    /// Calls task(number, worker) for every number below n_tasks, worker below size(); returns when all are done.
    /// The exception of the lowest-numbered task that threw is rethrown.
    void run(std::size_t n_tasks, const std::function<void(std::size_t, unsigned)>& task);

private:
    void work(unsigned worker);
    void wait_for_work(const std::stop_token& stop, unsigned worker);

    std::mutex mutex_;
    std::condition_variable_any wake_;
    std::condition_variable done_;
    const std::function<void(std::size_t, unsigned)>* task_ = nullptr;
    std::size_t n_tasks_ = 0;
    std::atomic<std::size_t> next_{0};
    std::size_t round_ = 0;
    unsigned busy_ = 0;
    std::exception_ptr error_;
    std::size_t error_task_ = 0;
    std::vector<std::jthread> threads_;
};

}  // namespace rivalfold
