"""``python -m tests.benchmarks`` prints every benchmark."""

from tests.benchmarks import browser_speed, headroom, layouts, model_speed, particles

if __name__ == "__main__":
    model_speed.main()
    headroom.main()
    particles.main()
    layouts.main()
    browser_speed.main()
