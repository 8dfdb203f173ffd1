using MathNet.Numerics.LinearAlgebra;

namespace Lampwarden.Analysis.Fitting;

/// <summary>How a fit ended.</summary>
public enum FitEnd
{
    /// <summary>No step could lower the sum of squares by anything that matters.</summary>
    Converged,

    /// <summary>The limit of evaluations was reached first.</summary>
    OutOfEvaluations,

    /// <summary>The parameters run away, or two of them do the same: the data do not determine them.</summary>
    Undetermined,
}

/// <summary>The outcome of a fit.</summary>
/// <param name="Parameters">Best found.</param>
/// <param name="StandardErrors">One sigma of each, from the residuals; NaN where the data do not determine it.</param>
/// <param name="Covariance">Of the parameters.</param>
/// <param name="SumOfSquares">Of the weighted residuals.</param>
/// <param name="ResidualDeviation">Root of the sum over the degrees of freedom.</param>
/// <param name="End">How it ended; only <see cref="FitEnd.Converged"/> is an answer.</param>
/// <param name="Evaluations">Of the model.</param>
public sealed record FitResult(
    IReadOnlyList<double> Parameters,
    IReadOnlyList<double> StandardErrors,
    Matrix<double> Covariance,
    double SumOfSquares,
    double ResidualDeviation,
    FitEnd End,
    int Evaluations);

/// <summary>
/// Nonlinear least squares by Levenberg and Marquardt: D. W. Marquardt, J. Soc. Indust. Appl. Math. 11 (1963) 431, with the column scaling of
/// J. J. Moré (Lecture Notes in Mathematics 630, 1978) and steps from a QR decomposition, which keeps twice the digits that the normal
/// equations would. Stop rule: a step that changes no parameter by more than one part in 1e11 of its size, or a sum of squares that the
/// linear model says cannot fall by one part in 1e15.
/// </summary>
public static class LeastSquares
{
    private const double StepTolerance = 1e-11;
    private const double GainTolerance = 1e-15;
    private const double LargestDamping = 1e15;

    // Below this reciprocal condition of the scaled Jacobian the parameters cannot be told apart.
    private const double LeastReciprocalCondition = 1e-13;

    /// <summary>Fits a model.</summary>
    /// <param name="residuals">Weighted residuals (data less model, over sigma) at a set of parameters; NaN or infinity turns a step back.</param>
    /// <param name="start">Where to begin.</param>
    /// <param name="mostEvaluations">Limit on calls of the model, not counting the slopes.</param>
    /// <exception cref="ArgumentException">The model fails at the start, or there are fewer residuals than parameters.</exception>
    public static FitResult Fit(Func<IReadOnlyList<double>, double[]> residuals, IReadOnlyList<double> start, int mostEvaluations = 5000)
    {
        var parameters = start.ToArray();
        var current = residuals(parameters);
        var sum = Sum(current);
        if (current.Length < parameters.Length || !double.IsFinite(sum))
        {
            throw new ArgumentException($"The fit cannot begin: {current.Length} residuals for {parameters.Length} parameters, sum of squares {sum} at the start.", nameof(start));
        }

        var scale = new double[parameters.Length];
        double damping = 1e-3, growth = 2;
        var (evaluations, end) = (1, FitEnd.OutOfEvaluations);
        while (evaluations < mostEvaluations && end == FitEnd.OutOfEvaluations)
        {
            var jacobian = Slopes(residuals, parameters, current.Length);
            for (var column = 0; column < scale.Length; column++)
            {
                scale[column] = Math.Max(scale[column], Math.Max(jacobian.Column(column).L2Norm(), 1e-300));
            }

            while (true)
            {
                var step = Step(jacobian, current, scale, damping);
                var predicted = sum - Sum([.. (Vector<double>.Build.Dense(current) + jacobian * step)]);
                var moved = parameters.Zip(step, (value, change) => value + change).ToArray();
                var isTiny = parameters.Zip(step, (value, change) => Math.Abs(change) <= StepTolerance * (Math.Abs(value) + StepTolerance)).All(small => small);
                var next = residuals(moved);
                evaluations++;
                var nextSum = Sum(next);
                var gain = sum - nextSum;
                if (double.IsFinite(nextSum) && gain >= 0)
                {
                    // Nielsen's rule: the better the linear model foretold the gain, the less damping.
                    var ratio = predicted > 0 ? gain / predicted : 0;
                    damping = Math.Max(1e-18, damping * Math.Max(1.0 / 3, 1 - Math.Pow(2 * ratio - 1, 3)));
                    growth = 2;
                    (parameters, current, sum) = (moved, next, nextSum);
                    if (isTiny || (predicted <= GainTolerance * sum && gain <= GainTolerance * sum) || sum == 0)
                    {
                        end = FitEnd.Converged;
                    }

                    break;
                }

                if (isTiny || evaluations >= mostEvaluations)
                {
                    end = isTiny ? FitEnd.Converged : FitEnd.OutOfEvaluations;
                    break;
                }

                damping *= growth;
                growth *= 2;
                if (damping > LargestDamping)
                {
                    end = predicted <= 1e-10 * sum ? FitEnd.Converged : FitEnd.Undetermined;
                    break;
                }
            }

            if (evaluations >= mostEvaluations && end == FitEnd.OutOfEvaluations)
            {
                break;
            }
        }

        return Conclude(residuals, parameters, current, sum, end, evaluations);
    }

    private static FitResult Conclude(
        Func<IReadOnlyList<double>, double[]> residuals, double[] parameters, double[] current, double sum, FitEnd end, int evaluations)
    {
        var jacobian = Slopes(residuals, parameters, current.Length);
        var norms = Vector<double>.Build.Dense([.. Enumerable.Range(0, parameters.Length).Select(column => Math.Max(jacobian.Column(column).L2Norm(), 1e-300))]);
        var scaled = Matrix<double>.Build.Dense(current.Length, parameters.Length, (row, column) => jacobian[row, column] / norms[column]);
        var factors = scaled.Svd(true);
        var freedom = current.Length - parameters.Length;
        var deviation = freedom > 0 ? Math.Sqrt(sum / freedom) : double.NaN;
        var condition = factors.S[^1] / factors.S[0];
        var covariance = Matrix<double>.Build.Dense(parameters.Length, parameters.Length, double.NaN);
        if (condition > LeastReciprocalCondition)
        {
            var right = factors.VT.Transpose() * Matrix<double>.Build.DenseOfDiagonalVector(factors.S.Map(value => 1 / value));
            covariance = right * right.Transpose();
            covariance.MapIndexedInplace((row, column, value) => value * deviation * deviation / (norms[row] * norms[column]));
        }
        else if (end == FitEnd.Converged)
        {
            end = FitEnd.Undetermined;
        }

        return new FitResult(parameters, [.. covariance.Diagonal().Select(Math.Sqrt)], covariance, sum, deviation, end, evaluations);
    }

    // min |J s + r|^2 + damping |D s|^2 as one taller least-squares problem.
    private static Vector<double> Step(Matrix<double> jacobian, double[] residuals, double[] scale, double damping)
    {
        var (rows, columns) = (jacobian.RowCount, jacobian.ColumnCount);
        var tall = Matrix<double>.Build.Dense(rows + columns, columns);
        var right = Vector<double>.Build.Dense(rows + columns);
        for (var column = 0; column < columns; column++)
        {
            for (var row = 0; row < rows; row++)
            {
                tall[row, column] = jacobian[row, column] / scale[column];
            }

            tall[rows + column, column] = Math.Sqrt(damping);
        }

        for (var row = 0; row < rows; row++)
        {
            right[row] = -residuals[row];
        }

        var scaled = tall.QR(MathNet.Numerics.LinearAlgebra.Factorization.QRMethod.Thin).Solve(right);
        return scaled.PointwiseDivide(Vector<double>.Build.Dense(scale));
    }

    // Central differences, refined once by Richardson: error of fourth order in the step.
    private static Matrix<double> Slopes(Func<IReadOnlyList<double>, double[]> residuals, double[] parameters, int rows)
    {
        var jacobian = Matrix<double>.Build.Dense(rows, parameters.Length);
        for (var column = 0; column < parameters.Length; column++)
        {
            var value = parameters[column];
            var step = 1e-3 * Math.Max(Math.Abs(value), 1e-8);
            var (far, near) = (Difference(step), Difference(0.5 * step));
            for (var row = 0; row < rows; row++)
            {
                var slope = (4 * near[row] - far[row]) / 3;
                jacobian[row, column] = double.IsFinite(slope) ? slope : 0;
            }

            parameters[column] = value;

            double[] Difference(double width)
            {
                parameters[column] = value + width;
                var above = residuals(parameters);
                parameters[column] = value - width;
                var below = residuals(parameters);
                parameters[column] = value;
                return [.. above.Zip(below, (high, low) => (high - low) / (2 * width))];
            }
        }

        return jacobian;
    }

    private static double Sum(double[] residuals) => residuals.Sum(value => value * value);
}
