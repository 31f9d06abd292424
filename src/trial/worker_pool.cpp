#include "trial/worker_pool.hpp"

namespace rivalfold {

WorkerPool::WorkerPool(unsigned threads) {
    for (unsigned worker = 1; worker < threads; ++worker)
        threads_.emplace_back([this, worker](const std::stop_token& stop) { wait_for_work(stop, worker); });
}

WorkerPool::~WorkerPool() {
    for (std::jthread& thread : threads_) thread.request_stop();
    wake_.notify_all();
}

void WorkerPool::wait_for_work(const std::stop_token& stop, unsigned worker) {
    std::size_t last_round = 0;
    for (;;) {
        {
            std::unique_lock lock(mutex_);
            if (!wake_.wait(lock, stop, [&] { return round_ != last_round; })) return;
            last_round = round_;
        }
        work(worker);
        std::lock_guard lock(mutex_);
        if (--busy_ == 0) done_.notify_one();
    }
}

void WorkerPool::work(unsigned worker) {
    for (std::size_t number = next_.fetch_add(1); number < n_tasks_; number = next_.fetch_add(1)) {
        try {
            (*task_)(number, worker);
        } catch (...) {
            std::lock_guard lock(mutex_);
            if (!error_ || number < error_task_) {
                error_ = std::current_exception();
                error_task_ = number;
            }
        }
    }
}

void WorkerPool::run(std::size_t n_tasks, const std::function<void(std::size_t, unsigned)>& task) {
    {
        std::lock_guard lock(mutex_);
        task_ = &task;
        n_tasks_ = n_tasks;
        next_ = 0;
        error_ = nullptr;
        busy_ = n_tasks > 1 ? static_cast<unsigned>(threads_.size()) : 0;
        if (busy_ > 0) ++round_;
    }
    if (n_tasks > 1) wake_.notify_all();
    work(0);
    std::unique_lock lock(mutex_);
    done_.wait(lock, [&] { return busy_ == 0; });
    if (error_) std::rethrow_exception(error_);
}

}  // namespace rivalfold
