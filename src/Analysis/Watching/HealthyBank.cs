namespace Lampwarden.Analysis.Watching;

/// <summary>
/// Several healthy models side by side, the likeliest leading. At first they differ in the warm-up's time constant; when that is known they
/// differ in how restless the ambient is taken to be.
/// </summary>
internal sealed class HealthyBank
{
    private const double ChooseSeconds = 1800;
    private const double HuberLimit = 3.5;

    // The design figure, and two worse ones (a room kept by a thermostat) that have to prove themselves by likelihood, on readings older
    // than a quarter of an hour, so that a fault cannot pass for a restless room.
    private const double Proof = 6, MostProof = 25, LagSeconds = 900;
    private static readonly (double Sd, double Tau)[] Ambients = [(0.003, 3600), (0.0045, 1200), (0.008, 900)];
    private static readonly double[] WarmTaus = [240, 400, 600, 840, 1180, 1650, 2300, 3300];

    private readonly HealthyModel[] models;
    private readonly double[] proof = new double[3];
    private readonly double[] pendingProof = new double[3];
    private readonly double[] laggedProof = new double[3];
    private double lagFrom = double.NaN;
    private int lead;
    private bool chosen;

    public HealthyBank(bool mainsMeasured) =>
        models = Array.ConvertAll(WarmTaus, _ => new HealthyModel(mainsMeasured));

    public HealthyModel Lead => models[lead];

    /// <summary>Begins from a first level, ln A at nominal mains.</summary>
    public void Start(double level, double warmSd, double exponent, double exponentSd)
    {
        for (var i = 0; i < models.Length; i++)
        {
            models[i].AssumeAmbient(Ambients[0].Sd, Ambients[0].Tau);
            models[i].Start(level, 0.5, warmSd, WarmTaus[i], 0.2, exponent, exponentSd);
        }

        (lead, chosen) = (0, false);
    }

    /// <summary>Carries all models over a time step and weighs the next block; <paramref name="weigh"/> sees the lead between comparing and learning.</summary>
    public void Compare(double step, double log, double mains, double noise, double mainsNoise)
    {
        for (var i = 0; i < (chosen ? Ambients.Length : models.Length); i++)
        {
            var model = models[i];
            model.Advance(step);
            model.Compare(log, mains, noise, mainsNoise);
            var tension = Math.Abs(model.Surprise) / Math.Sqrt(model.SurpriseVariance);
            if (tension > HuberLimit)
            {
                // Huber: a surprise beyond the limit counts as one at the limit.
                model.Compare(log, mains, noise + (model.SurpriseVariance * ((tension / HuberLimit) - 1)), mainsNoise);
            }
        }
    }

    /// <summary>Lets all models learn from the block compared; true if another took the lead.</summary>
    public bool Learn(double seconds, double ageSeconds, bool young)
    {
        for (var i = 0; i < (chosen ? Ambients.Length : models.Length); i++)
        {
            models[i].Learn();
        }

        var old = lead;
        if (chosen)
        {
            JudgeAmbient(seconds, young);
        }
        else
        {
            ChooseWarmUp();
            if (ageSeconds > ChooseSeconds)
            {
                Specialise();
                return false;
            }
        }

        return lead != old;
    }

    public void DoubtExponent(double sd) => Array.ForEach(models, model => model.DoubtExponent(sd));

    public void ShiftLevel(double by)
    {
        foreach (var model in models)
        {
            model.ShiftLevel(by, 0.003 + (0.1 * Math.Abs(by)));
        }
    }

    private void ChooseWarmUp()
    {
        for (var i = 0; i < models.Length; i++)
        {
            if (models[i].LogLikelihood > models[lead].LogLikelihood + 0.5)
            {
                lead = i;
            }
        }
    }

    /// <summary>The warm-up is known well enough: the places are taken by the one warm-up under several ambients.</summary>
    private void Specialise()
    {
        (models[0], models[lead]) = (models[lead], models[0]);
        (lead, chosen) = (0, true);
        for (var i = 0; i < Ambients.Length; i++)
        {
            models[i].CopyFrom(models[0]);
            models[i].AssumeAmbient(Ambients[i].Sd, Ambients[i].Tau);
            models[i].LogLikelihood = proof[i] = pendingProof[i] = laggedProof[i] = 0;
        }

        lagFrom = double.NaN;
    }

    private void JudgeAmbient(double seconds, bool young)
    {
        for (var i = 1; i < Ambients.Length; i++)
        {
            proof[i] = Math.Clamp(proof[i] + models[i].LogLikelihood - models[0].LogLikelihood, -Proof, MostProof);
            models[i].LogLikelihood = 0;
        }

        models[0].LogLikelihood = 0;
        if (double.IsNaN(lagFrom) || seconds - lagFrom >= LagSeconds)
        {
            pendingProof.CopyTo(laggedProof, 0);
            proof.CopyTo(pendingProof, 0);
            lagFrom = seconds;
        }

        var (best, most) = (0, Proof);
        for (var i = 1; i < Ambients.Length; i++)
        {
            // In youth there is no old proof, and little fault to hide from it: the present one counts. The leader keeps the lead on a tie.
            var counts = (young ? proof[i] : Math.Min(laggedProof[i], pendingProof[i])) + (i == lead ? Proof : 0);
            if (counts > most)
            {
                (best, most) = (i, counts);
            }
        }

        lead = best;
    }

    public void Transfer(StateStream state)
    {
        foreach (var model in models)
        {
            model.Transfer(state);
        }

        state.Fields(proof);
        state.Fields(pendingProof);
        state.Fields(laggedProof);
        state.Field(ref lagFrom);
        state.Field(ref lead);
        state.Field(ref chosen);
    }
}
