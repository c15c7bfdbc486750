namespace Pipeline.Numerics;

/// <summary>The state of one search; see <see cref="LeastSquares"/>.</summary>
sealed class LeastSquaresSearch
{
    readonly ResidualFunction _residual;
    readonly int _n, _p;
    readonly double[]? _low, _high;
    readonly double[] _x, _trial, _r, _trialR, _j, _scale, _step, _a, _b;
    readonly double _tolerance;
    double _sum, _damping = 1e-3, _growth = 2;
    int _accepted;
    bool _converged;

    public LeastSquaresSearch(ResidualFunction residual, int count, double[] start, double[]? low, double[]? high, double tolerance)
    {
        (_residual, _n, _p, _low, _high, _tolerance) = (residual, count, start.Length, low, high, tolerance);
        _x = [.. start];
        (_trial, _scale, _step) = (new double[_p], new double[_p], new double[_p]);
        (_r, _trialR, _j) = (new double[_n], new double[_n], new double[_n * _p]);
        (_a, _b) = (new double[(_n + _p) * _p], new double[_n + _p]);
        Project(_x);
        _residual(_x, _r, _j);
        _sum = Cholesky.Dot(_r, _r);
        if (!double.IsFinite(_sum)) throw new ArgumentOutOfRangeException(nameof(start), _sum, "the residuals at the start must be finite");
        UpdateScale();
        KeepFirstStepShort();
    }

    public bool Finished { get; private set; }

    public LeastSquaresResult Result() =>
        new([.. _x], _sum, _converged, _accepted, NormalMatrix(), [.. Enumerable.Range(0, _p).Select(OnBound)]);

    public void Step()
    {
        bool[] held = HeldAtBound();
        if (GradientVanishes(held)) { (Finished, _converged) = (true, true); return; }
        double predicted = DampedStep(held);
        for (int k = 0; k < _p; k++) _trial[k] = _x[k] + _step[k];
        Project(_trial);
        _residual(_trial, _trialR, []);
        double sum = Cholesky.Dot(_trialR, _trialR);
        double gain = (_sum - sum) / Math.Max(predicted, double.Epsilon);
        // the predicted decrease drowns in rounding: the last step polishes the parameters, and nothing more can be seen
        if (predicted <= 1e-12 * _sum && sum <= _sum * (1 + 1e-13)) { Accept(sum, 1); (Finished, _converged) = (true, true); }
        else if (double.IsFinite(sum) && sum <= _sum && gain > 1e-4) Accept(sum, gain);
        else Reject(predicted);
    }

    /// <summary>The first step is no longer than the start itself, in scaled units: the initial trust region of Moré (1978). A longer
    /// one may land where the model is flat, which looks like a minimum.</summary>
    void KeepFirstStepShort()
    {
        double radius = ScaledLength(_x);
        if (radius == 0) return;
        bool[] held = HeldAtBound();
        for (int k = 0; k < 100; k++, _damping *= 2)
        {
            DampedStep(held);
            if (ScaledLength(_step) <= radius) return;
        }
    }

    double ScaledLength(double[] v)
    {
        double sum = 0;
        for (int k = 0; k < _p; k++) sum += _scale[k] * v[k] * _scale[k] * v[k];
        return Math.Sqrt(sum);
    }

    void Accept(double sum, double gain)
    {
        bool tiny = StepIsTiny();
        double before = _sum;
        _trial.CopyTo(_x, 0);
        _residual(_x, _r, _j);
        (_sum, _accepted) = (sum, _accepted + 1);
        UpdateScale();
        double g = 2 * gain - 1;
        _damping = Math.Max(1e-15, _damping * Math.Max(1.0 / 3, 1 - g * g * g));
        _growth = 2;
        if (tiny && before - sum <= 1e-14 * before) (Finished, _converged) = (true, true);
    }

    void Reject(double predicted)
    {
        // no further descent can be seen in double precision: a minimum if the model predicts none either
        if (StepIsTiny() || _damping > 1e20)
            (Finished, _converged) = (true, predicted <= 1e-8 * _sum || StepIsTiny());
        _damping *= _growth;
        _growth *= 2;
    }

    bool StepIsTiny()
    {
        for (int k = 0; k < _p; k++)
            if (Math.Abs(_trial[k] - _x[k]) > 1e-13 * (Math.Abs(_x[k]) + 1e-300)) return false;
        return true;
    }

    bool GradientVanishes(bool[] held)
    {
        double norm = Math.Sqrt(_sum);
        if (norm == 0) return true;
        for (int k = 0; k < _p; k++)
        {
            if (held[k] || _scale[k] == 0) continue;
            if (Math.Abs(Gradient(k)) > _tolerance * norm * ColumnNorm(k)) return false;
        }
        return true;
    }

    /// <summary>Minimises |J s + r|^2 + damping |D s|^2 over the parameters that may move; returns the predicted decrease.</summary>
    double DampedStep(bool[] held)
    {
        int[] free = [.. Enumerable.Range(0, _p).Where(k => !held[k])];
        int m = free.Length;
        for (int i = 0; i < _n; i++)
        {
            for (int k = 0; k < m; k++) _a[i * m + k] = _j[i * _p + free[k]];
            _b[i] = -_r[i];
        }
        _a.AsSpan(_n * m, m * m).Clear();
        _b.AsSpan(_n).Clear();
        for (int k = 0; k < m; k++) _a[(_n + k) * m + k] = Math.Sqrt(_damping) * _scale[free[k]];
        double[] s = Householder.Solve(_a, _b, _n + m, m);
        Array.Clear(_step);
        for (int k = 0; k < m; k++) _step[free[k]] = s[k];
        double linear = 0;
        for (int i = 0; i < _n; i++)
        {
            double moved = _r[i] + Cholesky.Dot(_j.AsSpan(i * _p, _p), _step);
            linear += moved * moved;
        }
        return _sum - linear;
    }

    bool[] HeldAtBound()
    {
        var held = new bool[_p];
        for (int k = 0; k < _p; k++)
        {
            double gradient = Gradient(k);
            held[k] = (_low is not null && _x[k] <= _low[k] && gradient > 0) || (_high is not null && _x[k] >= _high[k] && gradient < 0);
        }
        return held;
    }

    bool OnBound(int k) => (_low is not null && _x[k] <= _low[k]) || (_high is not null && _x[k] >= _high[k]);

    void Project(double[] x)
    {
        for (int k = 0; k < _p; k++)
        {
            if (_low is not null) x[k] = Math.Max(x[k], _low[k]);
            if (_high is not null) x[k] = Math.Min(x[k], _high[k]);
        }
    }

    double Gradient(int k)
    {
        double sum = 0;
        for (int i = 0; i < _n; i++) sum += _j[i * _p + k] * _r[i];
        return sum;
    }

    double ColumnNorm(int k)
    {
        double sum = 0;
        for (int i = 0; i < _n; i++) sum += _j[i * _p + k] * _j[i * _p + k];
        return Math.Sqrt(sum);
    }

    /// <summary>The scale of a parameter never falls (Moré), so that steps stay bounded where a derivative vanishes.</summary>
    void UpdateScale()
    {
        for (int k = 0; k < _p; k++) _scale[k] = Math.Max(_scale[k], ColumnNorm(k));
        for (int k = 0; k < _p; k++) if (_scale[k] == 0) _scale[k] = 1;
    }

    double[] NormalMatrix()
    {
        var normal = new double[_p * _p];
        for (int i = 0; i < _n; i++)
            for (int a = 0; a < _p; a++)
                for (int b = 0; b < _p; b++) normal[a * _p + b] += _j[i * _p + a] * _j[i * _p + b];
        return normal;
    }
}
