"""socibrain: does where people stand among others go with how their brains are organised?"""
